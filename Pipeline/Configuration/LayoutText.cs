using Pipeline.Ingest;

namespace Pipeline.Configuration;

/// <summary>A layout that is not in a configuration folder yet.</summary>
public static class LayoutText
{
    /// <exception cref="DataFaultException">The text is no valid layout of shot files.</exception>
    public static ShotFileLayout Read(string toml, string name)
    {
        string folder = Directory.CreateTempSubdirectory("arrivals-layout").FullName;
        try
        {
            File.WriteAllText(Path.Combine(folder, name + ".toml"), toml);
            return LayoutReader.Read(TomlFile.Read(folder, name + ".toml"), name) as ShotFileLayout
                ?? throw new DataFaultException(name, "a layout of predictions", "one of shot files", "choose another format");
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }
}
