using Pipeline.Apparatus;

namespace Pipeline.Ingest;

/// <summary>Opens run files through their layout. To add a format: a layout record, a source, and its line here.</summary>
public static class ShotFiles
{
    /// <param name="path">The run's main file.</param>
    /// <param name="layout">What it keeps where.</param>
    /// <param name="kind">What the detector records.</param>
    /// <exception cref="DataFaultException">The file cannot be used.</exception>
    public static IShotSource Open(string path, ShotFileLayout layout, DetectorKind kind) => layout switch
    {
        Hdf5MatrixLayout matrix => new Hdf5MatrixSource(path, matrix, kind),
        WideCsvLayout wide => new WideCsvSource(path, wide, kind),
        _ => throw new ArgumentOutOfRangeException(nameof(layout), layout.GetType().Name, "has no reader"),
    };
}
