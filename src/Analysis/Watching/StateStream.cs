using System.Text;

namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Carries state out of a watch or back into it. One method per part names its fields once, so that saving and restoring cannot disagree.
/// </summary>
internal sealed class StateStream
{
    private readonly BinaryWriter? writer;
    private readonly BinaryReader? reader;

    private StateStream(BinaryWriter? writer, BinaryReader? reader)
    {
        this.writer = writer;
        this.reader = reader;
    }

    /// <summary>True while restoring.</summary>
    public bool Reading => reader is not null;

    public static byte[] Save(Action<StateStream> transfer)
    {
        using var memory = new MemoryStream();
        using var writer = new BinaryWriter(memory, Encoding.UTF8);
        transfer(new StateStream(writer, null));
        writer.Flush();
        return memory.ToArray();
    }

    public static void Restore(ReadOnlySpan<byte> saved, Action<StateStream> transfer)
    {
        using var reader = new BinaryReader(new MemoryStream(saved.ToArray()), Encoding.UTF8);
        try
        {
            transfer(new StateStream(null, reader));
        }
        catch (EndOfStreamException fault)
        {
            throw new FormatException("The saved state of the watch ends too early; it was cut short or belongs to another version.", fault);
        }
    }

    public void Field(ref double value)
    {
        if (reader is not null)
        {
            value = reader.ReadDouble();
        }
        else
        {
            writer!.Write(value);
        }
    }

    public void Field(ref float value)
    {
        if (reader is not null)
        {
            value = reader.ReadSingle();
        }
        else
        {
            writer!.Write(value);
        }
    }

    public void Field(ref int value)
    {
        if (reader is not null)
        {
            value = reader.ReadInt32();
        }
        else
        {
            writer!.Write(value);
        }
    }

    public void Field(ref long value)
    {
        if (reader is not null)
        {
            value = reader.ReadInt64();
        }
        else
        {
            writer!.Write(value);
        }
    }

    public void Field(ref bool value)
    {
        if (reader is not null)
        {
            value = reader.ReadBoolean();
        }
        else
        {
            writer!.Write(value);
        }
    }

    public void Field(ref string value)
    {
        if (reader is not null)
        {
            value = reader.ReadString();
        }
        else
        {
            writer!.Write(value);
        }
    }

    public void Fields(Span<double> values)
    {
        foreach (ref var value in values)
        {
            Field(ref value);
        }
    }

    public void Fields(Span<float> values)
    {
        foreach (ref var value in values)
        {
            Field(ref value);
        }
    }

    public void Field<T>(ref T value)
        where T : struct, Enum
    {
        var number = Convert.ToInt32(value, System.Globalization.CultureInfo.InvariantCulture);
        Field(ref number);
        value = (T)Enum.ToObject(typeof(T), number);
    }
}
