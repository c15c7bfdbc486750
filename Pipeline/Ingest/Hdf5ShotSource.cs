using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>What all sources over an HDF5 file share: the open file, closed again if its head cannot be read.</summary>
abstract class Hdf5ShotSource : IShotSource
{
    ShotInfo[] _shots = [];

    protected Hdf5ShotSource(string path, ShotFileLayout layout, Hdf5Access? access)
    {
        (Path, Name) = (path, System.IO.Path.GetFileName(path));
        InputFiles = layout.Shots is { Place: HousekeepingPlace.File, PlaceName: { } table } ? [path, ShotTable.Beside(path, table)] : [path];
        File = Hdf5Files.Open(path, (access ?? Hdf5Access.Usual) with { ExternalLinks = layout.ExternalLinks });
    }

    protected string Path { get; }

    protected IHdf5File File { get; }
    /// <summary>For faults.</summary>
    protected string Name { get; }
    public RecordShape Shape { get; private set; } = null!;
    public IReadOnlyList<string> InputFiles { get; }
    public virtual IReadOnlyList<ShotInfo> Shots => _shots;
    public string Reader => File.Reader;

    public void Dispose() => File.Dispose();

    public abstract IEnumerable<ShotBlock> ReadBlocks();

    /// <summary>Housekeeping from one position on.</summary>
    protected ShotInfo[] ShotsFrom(int first, int count) => _shots[first..Math.Min(first + count, _shots.Length)];

    /// <summary>Reads shape and housekeeping.</summary>
    protected void Begin(Func<(RecordShape, ShotInfo[])> read)
    {
        try
        {
            (Shape, _shots) = read();
        }
        catch
        {
            File.Dispose();
            throw;
        }
    }
}
