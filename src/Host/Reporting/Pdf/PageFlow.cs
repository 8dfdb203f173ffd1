using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pdf;

/// <summary>
/// Puts things one below the other and turns the page when one does not fit. Pages are recorded first, because the footer
/// names how many there are.
/// </summary>
internal sealed class PageFlow : IDisposable
{
    public const float Margin = 50;
    private const float FooterHeight = 34;

    private readonly Paper _paper;
    private readonly List<SKPicture> _pages = [];
    private SKPictureRecorder? _recorder;

    public PageFlow(Paper paper)
    {
        _paper = paper;
        Turn();
    }

    public SKCanvas Canvas { get; private set; } = null!;

    /// <summary>Where the next thing goes.</summary>
    public float Y { get; private set; }

    public float Left { get; } = Margin;

    public float Width => _paper.Width - (2 * Margin);

    private float Bottom => _paper.Height - Margin - FooterHeight + 10;

    public bool IsAtTop => Y <= Margin;

    /// <summary>Turns the page unless so much still fits.</summary>
    public void Need(float height)
    {
        if (Y + height > Bottom && !IsAtTop)
        {
            Turn();
        }
    }

    public void Down(float height) => Y += height;

    public IReadOnlyList<SKPicture> End()
    {
        Close();
        return _pages;
    }

    public void Dispose()
    {
        _recorder?.Dispose();
        foreach (var page in _pages)
        {
            page.Dispose();
        }
    }

    private void Turn()
    {
        Close();
        _recorder = new SKPictureRecorder();
        Canvas = _recorder.BeginRecording(SKRect.Create(_paper.Width, _paper.Height));
        Y = Margin;
    }

    private void Close()
    {
        if (_recorder is not null)
        {
            _pages.Add(_recorder.EndRecording());
            _recorder.Dispose();
            _recorder = null;
        }
    }
}
