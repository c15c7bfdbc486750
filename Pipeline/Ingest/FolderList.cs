namespace Pipeline.Ingest;

/// <summary>What stands in a folder.</summary>
public static class FolderList
{
    /// <summary>Paths of files and folders in ordinal order.</summary>
    /// <exception cref="DataFaultException">The folder cannot be read.</exception>
    public static string[] Of(string folder, string pattern = "*")
    {
        try { return [.. Directory.GetFileSystemEntries(folder, pattern).Order(StringComparer.Ordinal)]; }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(folder, $"a folder that cannot be read ({e.Message})", "a readable folder", "check name and permission");
        }
    }
}
