using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>The store cannot do what was asked. The message says what, where, and what to do; the command line exits with 3.</summary>
public sealed class StoreException : IOException
{
    public StoreException()
    {
    }

    public StoreException(string message)
        : base(message)
    {
    }

    public StoreException(string message, Exception? innerException)
        : base(message, innerException)
    {
    }

    // Primary result codes: sqlite.org/rescode.html.
    internal const int Busy = 5;
    internal const int Locked = 6;
    internal const int OutOfMemory = 7;
    internal const int ReadOnly = 8;
    internal const int InputOutput = 10;
    internal const int Corrupt = 11;
    internal const int Full = 13;
    internal const int CannotOpen = 14;
    internal const int NotADatabase = 26;

    internal static StoreException From(SqliteException trouble, string doing, string path) =>
        new($"{doing} {path} failed: {Reason(trouble)}.", trouble);

    /// <summary>Whether the medium is to blame, so that trying again later makes sense, rather than the entry itself.</summary>
    internal static bool IsOfTheMedium(SqliteException trouble) => trouble.SqliteErrorCode
        is Busy or Locked or OutOfMemory or ReadOnly or InputOutput or Corrupt or Full or CannotOpen or NotADatabase;

    internal static string Reason(SqliteException trouble) => trouble.SqliteErrorCode switch
    {
        Full => "the disk is full (free some space: recording goes on by itself)",
        ReadOnly => "the file or its folder is read-only (check the permissions, or give another folder with --record)",
        InputOutput => $"the disk refuses to read or write ({trouble.Message}; look at the medium and its cable)",
        Corrupt => "the file is damaged (keep a copy; 'lampwarden export' still reads the runs that are whole; record into a new folder)",
        NotADatabase => "the file is not a store of this program, or its first page is damaged (move it aside, or give another folder)",
        CannotOpen => "the file cannot be opened (check that the folder exists and may be written)",
        Busy or Locked => "another program holds the file locked (end it, or wait)",
        _ => trouble.Message,
    };
}
