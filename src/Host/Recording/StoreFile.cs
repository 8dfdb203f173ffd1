using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>The file of a store and how it can be opened here.</summary>
/// <param name="Path">Absolute.</param>
/// <param name="Immutable">
/// The medium cannot be written at all, so SQLite may not even make its helper files beside the file; it then reads the
/// file alone. What a killed program left in the write-ahead log beside it is not seen that way.
/// </param>
internal sealed record StoreFile(string Path, bool Immutable = false)
{
    public SqliteConnection Connect(SqliteOpenMode mode)
    {
        var connection = new SqliteConnection(new SqliteConnectionStringBuilder
        {
            DataSource = Immutable ? $"file:{Uri.EscapeDataString(Path).Replace("%2F", "/", StringComparison.Ordinal)}?immutable=1" : Path,
            Mode = mode,
            Pooling = false,
            DefaultTimeout = 5,
        }.ToString());
        connection.Open();
        return connection;
    }
}
