using Pipeline.Apparatus;
using Pipeline.Hdf5;

namespace Pipeline.Ingest;

/// <summary>Opens run files through their layout. To add a format: a layout record, a source, and its line here.</summary>
public static class ShotFiles
{
    /// <param name="path">The run's main file.</param>
    /// <param name="layout">What it keeps where.</param>
    /// <param name="kind">What the detector records.</param>
    /// <param name="access">HDF5: which library reads.</param>
    /// <exception cref="DataFaultException">The file cannot be used.</exception>
    public static IShotSource Open(string path, ShotFileLayout layout, DetectorKind kind, Hdf5Access? access = null) => layout switch
    {
        Hdf5MatrixLayout matrix => new Hdf5MatrixSource(path, matrix, kind, access),
        WideCsvLayout wide => new WideCsvSource(path, wide, kind),
        LongCsvLayout list => new LongCsvSource(path, list, kind),
        CsvFolderLayout folder => new CsvFolderSource(path, folder, kind),
        Hdf5StampsLayout stamps => new Hdf5StampsSource(path, stamps, kind, access),
        Hdf5GroupsLayout groups => new Hdf5GroupsSource(path, groups, kind, access),
        Hdf5ClassesLayout classes => new Hdf5ClassesSource(path, classes, kind, access),
        _ => throw new ArgumentOutOfRangeException(nameof(layout), layout.GetType().Name, "has no reader"),
    };
}
