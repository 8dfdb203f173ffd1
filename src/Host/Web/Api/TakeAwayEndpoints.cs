using System.ComponentModel;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Exchange;
using Lampwarden.Host.Reporting;
using Lampwarden.Host.Reporting.Pdf;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>A run as a file: readings, the whole of it, or its report. Each is what the command line writes.</summary>
internal static class TakeAwayEndpoints
{
    public static void Map(IEndpointRouteBuilder api)
    {
        var runs = api.MapGroup("/runs/{run}").WithTags("Runs");
        runs.MapGet("/export", ExportAsync).WithSummary("The run's readings as CSV or Parquet, or the whole run as an archive")
            .Produces(StatusCodes.Status200OK, contentType: "text/csv");
        runs.MapGet("/report", ReportAsync).WithSummary("The record that goes back with the unit, as PDF or HTML")
            .Produces(StatusCodes.Status200OK, contentType: "application/pdf");
    }

    private static async Task<Results<FileStreamHttpResult, ProblemHttpResult>> ExportAsync(
        string run, SoakStore store, CancellationToken cancellation, [Description("csv, parquet or archive")] string format = "csv")
    {
        var record = store.Run(run);
        switch (format)
        {
            case "csv":
                return await FileAsync(run + ".csv", "text/csv", async stream =>
                {
                    await using var writer = new StreamWriter(stream, leaveOpen: true);
                    CsvSeries.Write(writer, store.Readings(run), store.HasVolts(run));
                });
            case "parquet":
                return await FileAsync(run + ".parquet", "application/vnd.apache.parquet", stream =>
                    ParquetSeries.WriteAsync(stream, RunArchive.ToJson(record), store.Readings(run), cancellation));
            case "archive":
                return await FileAsync(run + ".zip", "application/zip", stream =>
                {
                    RunArchive.Write(stream, store, run);
                    return Task.CompletedTask;
                });
            default:
                return Problems.Bad($"format is '{format}'; expected csv, parquet or archive.");
        }
    }

    private static async Task<Results<FileStreamHttpResult, ProblemHttpResult>> ReportAsync(
        string run, SoakStore store, HttpContext context, [Description("pdf or html")] string format = "pdf", [Description("A4 or Letter")] string paper = "A4")
    {
        if (format is not ("pdf" or "html") || paper is not ("A4" or "Letter"))
        {
            return Problems.Bad($"format is '{format}', paper '{paper}'; expected pdf or html, and A4 or Letter.");
        }

        var sheet = paper == "Letter" ? Paper.Letter : Paper.A4;
        var content = ReportBuilder.Build(store, run, TimeProvider.System.GetUtcNow());
        // A report brings its own styles and pictures; as a page of this host it may do nothing else.
        context.Response.Headers.ContentSecurityPolicy = "sandbox; default-src 'none'; style-src 'unsafe-inline'; img-src data:";
        return format == "pdf"
            ? await FileAsync($"soak-{run}.pdf", "application/pdf", stream =>
            {
                PdfReport.Write(stream, content, sheet);
                return Task.CompletedTask;
            })
            : await FileAsync($"soak-{run}.html", "text/html", async stream => await stream.WriteAsync(System.Text.Encoding.UTF8.GetBytes(HtmlReport.Write(content, sheet))));
    }

    // Made whole before the first byte is sent: a failure is then a problem, not half a file that looks whole.
    private static async Task<FileStreamHttpResult> FileAsync(string name, string type, Func<Stream, Task> write)
    {
        var file = new FileStream(Path.GetTempFileName(), FileMode.Create, FileAccess.ReadWrite, FileShare.None, 1 << 16, FileOptions.DeleteOnClose | FileOptions.Asynchronous);
        try
        {
            await write(file);
            file.Position = 0;
            return TypedResults.File(file, type, name);
        }
        catch
        {
            await file.DisposeAsync();
            throw;
        }
    }
}
