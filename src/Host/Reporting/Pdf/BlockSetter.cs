using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pdf;

/// <summary>Sets the blocks of a section.</summary>
internal sealed class BlockSetter(PageFlow flow, TextSetter text)
{
    private const float Size = 9.2f;
    private const float SmallSize = 8;
    private const float HeadingSize = 12.5f;

    // A table up to this height is not cut by a page's end.
    private const float LongTable = 260;
    private const float HeadingSpace = 40;
    private const float Padding = 9;

    private static readonly SKColor Faint = new(0x55, 0x55, 0x55);

    public void Set(ReportSection section)
    {
        // A heading never stands alone at the foot of a page.
        flow.Need(HeadingSpace + section.Blocks switch
        {
            [ReportPicture picture, ..] => flow.Width * (float)picture.Height,
            [ReportTable table, ..] => Math.Min(Height(table), LongTable),
            _ => 34,
        });
        flow.Down(flow.IsAtTop ? 0 : 9);
        flow.Down(HeadingSize + 3);
        text.Draw(flow.Canvas, section.Heading, flow.Left, flow.Y, HeadingSize, bold: true);
        flow.Down(5);
        Rule(0.8f, SKColors.Black);
        flow.Down(4);
        foreach (var block in section.Blocks)
        {
            Set(block);
        }
    }

    private void Set(ReportBlock block)
    {
        switch (block)
        {
            case ReportText(var words, var small): Lines(words, 0, small ? SmallSize : Size, small ? Faint : SKColors.Black); flow.Down(3); break;
            case ReportList(var items): items.ToList().ForEach(Bullet); flow.Down(3); break;
            case ReportFacts(var facts): Facts(facts); break;
            case ReportTable table: Table(table); break;
            case ReportPicture picture: Picture(picture); break;
            case ReportPhoto photo: Photo(photo); break;
            case ReportSignature(var name, var date): Signature(name, date); break;
            default: throw new ArgumentOutOfRangeException(nameof(block), block, "a block that cannot be set");
        }
    }

    private void Lines(string words, float indent, float size, SKColor colour)
    {
        foreach (var line in text.Break(words, flow.Width - indent, size))
        {
            flow.Need(TextSetter.LineHeight(size));
            flow.Down(TextSetter.LineHeight(size));
            text.Draw(flow.Canvas, line, flow.Left + indent, flow.Y - (size * 0.35f), size, colour: colour);
        }
    }

    private void Bullet(string item)
    {
        flow.Need(TextSetter.LineHeight(Size));
        text.Draw(flow.Canvas, "•", flow.Left + 2, flow.Y + TextSetter.LineHeight(Size) - (Size * 0.35f), Size);
        Lines(item, 12, Size, SKColors.Black);
    }

    // Two columns of label and value; a long value takes as many lines as it needs within its column.
    private void Facts(IReadOnlyList<(string Label, string Value)> facts)
    {
        const float gap = 18;
        const float labelWidth = 84;
        var column = (flow.Width - gap) / 2;
        for (var i = 0; i < facts.Count; i += 2)
        {
            var pair = facts.Skip(i).Take(2).Select(fact => (fact.Label, Lines: text.Break(fact.Value, column - labelWidth, Size))).ToList();
            var height = pair.Max(fact => fact.Lines.Count) * TextSetter.LineHeight(Size);
            flow.Need(height);
            for (var side = 0; side < pair.Count; side++)
            {
                var x = flow.Left + (side * (column + gap));
                var baseline = flow.Y + TextSetter.LineHeight(Size) - (Size * 0.35f);
                text.Draw(flow.Canvas, pair[side].Label, x, baseline, Size, colour: Faint);
                for (var line = 0; line < pair[side].Lines.Count; line++)
                {
                    text.Draw(flow.Canvas, pair[side].Lines[line], x + labelWidth, baseline + (line * TextSetter.LineHeight(Size)), Size);
                }
            }

            flow.Down(height + 1.5f);
        }

        flow.Down(2);
    }

    private void Table(ReportTable table)
    {
        var widths = Widths(table);
        Row(table.Headers, bold: true);
        Rule(0.6f, SKColors.Black);
        foreach (var row in table.Rows)
        {
            Row(row, bold: false);
            Rule(0.3f, Faint);
        }

        flow.Down(5);

        void Row(IReadOnlyList<string> cells, bool bold)
        {
            var broken = Broken(cells, widths, bold);
            var height = RowHeight(broken);
            flow.Need(height);
            var x = flow.Left;
            for (var index = 0; index < cells.Count; index++)
            {
                var numeric = table.Numeric.Contains(index);
                for (var line = 0; line < broken[index].Count; line++)
                {
                    var baseline = flow.Y + ((line + 1) * TextSetter.LineHeight(SmallSize + 0.6f)) - 2.2f;
                    text.Draw(flow.Canvas, broken[index][line], numeric ? x + widths[index] - Padding : x, baseline, SmallSize + 0.6f, bold, numeric ? SKTextAlign.Right : SKTextAlign.Left);
                }

                x += widths[index];
            }

            flow.Down(height);
        }
    }

    private List<float> Widths(ReportTable table) => [.. table.Widths.Select(share => (float)(share / table.Widths.Sum()) * flow.Width)];

    private List<List<string>> Broken(IReadOnlyList<string> cells, List<float> widths, bool bold) =>
        [.. cells.Select((cell, index) => text.Break(cell, widths[index] - Padding, SmallSize + 0.6f, bold))];

    private static float RowHeight(List<List<string>> broken) => (broken.Max(lines => lines.Count) * TextSetter.LineHeight(SmallSize + 0.6f)) + 3;

    private float Height(ReportTable table) =>
        table.Rows.Prepend(table.Headers).Sum(row => RowHeight(Broken(row, Widths(table), bold: row == table.Headers)) + 1);

    private void Picture(ReportPicture block)
    {
        var height = flow.Width * (float)block.Height;
        flow.Need(height + TextSetter.LineHeight(SmallSize) + 4);
        flow.Canvas.Save();
        flow.Canvas.Translate(flow.Left, flow.Y + 2);
        flow.Canvas.ClipRect(SKRect.Create(flow.Width, height));
        block.Picture.Draw(flow.Canvas, flow.Width, height);
        flow.Canvas.Restore();
        flow.Down(height + 2);
        Lines(block.Caption, 0, SmallSize, Faint);
        flow.Down(4);
    }

    private void Photo(ReportPhoto photo)
    {
        using var bitmap = SKBitmap.Decode(photo.Bytes);
        if (bitmap is null)
        {
            Lines($"{photo.Caption} (the picture cannot be decoded; it is kept with the run)", 0, SmallSize, Faint);
            return;
        }

        var scale = Math.Min(flow.Width / bitmap.Width, 260f / bitmap.Height);
        flow.Need((bitmap.Height * scale) + TextSetter.LineHeight(SmallSize) + 6);
        using var image = SKImage.FromBitmap(bitmap);
        flow.Canvas.DrawImage(image, SKRect.Create(flow.Left, flow.Y + 2, bitmap.Width * scale, bitmap.Height * scale));
        flow.Down((bitmap.Height * scale) + 4);
        Lines(photo.Caption, 0, SmallSize, Faint);
        flow.Down(4);
    }

    private void Signature(string? name, string? date)
    {
        flow.Need(52);
        flow.Down(26);
        using var rule = new SKPaint { Color = SKColors.Black, StrokeWidth = 0.7f };
        var half = (flow.Width - 30) * 0.62f;
        var right = flow.Left + half + 30;
        text.Draw(flow.Canvas, name ?? "", flow.Left + 2, flow.Y - 3, 11);
        text.Draw(flow.Canvas, date ?? "", right + 2, flow.Y - 3, 11);
        flow.Canvas.DrawLine(flow.Left, flow.Y, flow.Left + half, flow.Y, rule);
        flow.Canvas.DrawLine(right, flow.Y, flow.Left + flow.Width, flow.Y, rule);
        flow.Down(11);
        text.Draw(flow.Canvas, name is null ? "checked by (name, signature)" : "checked by (typed)", flow.Left, flow.Y, SmallSize, colour: Faint);
        text.Draw(flow.Canvas, "date", right, flow.Y, SmallSize, colour: Faint);
        flow.Down(6);
    }

    private void Rule(float weight, SKColor colour)
    {
        using var paint = new SKPaint { Color = colour, StrokeWidth = weight };
        flow.Canvas.DrawLine(flow.Left, flow.Y, flow.Left + flow.Width, flow.Y, paint);
        flow.Down(1);
    }
}
