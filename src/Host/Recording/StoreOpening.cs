using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>What is done to the file before anything else: made, checked, brought to this version.</summary>
internal static class StoreOpening
{
    private const long AlwaysCheckedBytes = 64 << 20;

    public static StoreFile Prepare(string path, StoreMode mode)
    {
        var file = new StoreFile(path);
        if (mode == StoreMode.Recording)
        {
            using var connection = file.Connect(SqliteOpenMode.ReadWriteCreate);
            // auto_vacuum takes effect only before the first table: free pages go back to the disk when a run is closed.
            StoreSchema.Execute(connection, "PRAGMA auto_vacuum=INCREMENTAL; PRAGMA journal_mode=WAL; PRAGMA synchronous=FULL");
            StoreSchema.Migrate(connection, path);
            Check(connection, path);
            return file;
        }

        if (!File.Exists(path))
        {
            throw new StoreException($"There is no record in {Path.GetDirectoryName(path)} (no {SoakStore.FileName}). Name its folder with --record.");
        }

        return PrepareReview(file);
    }

    /// <summary>Notes that the file was closed in good order.</summary>
    public static void MarkClean(StoreFile file)
    {
        try
        {
            using var connection = file.Connect(SqliteOpenMode.ReadWrite);
            StoreSchema.Execute(connection, "INSERT OR REPLACE INTO meta VALUES ('closed', 'clean')");
        }
        catch (SqliteException)
        {
            // The next opening checks the whole file: that is all this mark would have spared it.
        }
    }

    // To look must work wherever a look is possible: on a read-only medium, and in a damaged file as far as it is whole.
    private static StoreFile PrepareReview(StoreFile file)
    {
        try
        {
            using var connection = file.Connect(SqliteOpenMode.ReadWrite);
            StoreSchema.Migrate(connection, file.Path);
            StoreSchema.Scalar(connection, "SELECT count(*) FROM meta");
            return file;
        }
        catch (SqliteException trouble) when (trouble.SqliteErrorCode is StoreException.ReadOnly or StoreException.CannotOpen)
        {
            file = file with { Immutable = true };
            using var connection = file.Connect(SqliteOpenMode.ReadOnly);
            StoreSchema.RefuseOtherVersions(connection, file.Path);
            return file;
        }
    }

    // A large file that was closed properly is not read through at every start; every chunk carries a check sum of its own anyway.
    private static void Check(SqliteConnection connection, string path)
    {
        var clean = StoreSchema.Scalar(connection, "SELECT count(*) FROM meta WHERE key='closed' AND value='clean'") == 1;
        if (!clean || new FileInfo(path).Length < AlwaysCheckedBytes)
        {
            using var command = connection.CreateCommand();
            command.CommandText = "PRAGMA quick_check(1)";
            if (command.ExecuteScalar() as string is var found && found != "ok")
            {
                throw new StoreException(
                    $"{path} is damaged ({found}). Nothing was changed. Keep a copy, read what is whole with 'lampwarden runs' and "
                    + "'lampwarden export', and record into a new folder with --record.");
            }
        }

        StoreSchema.Execute(connection, "DELETE FROM meta WHERE key='closed'");
    }
}
