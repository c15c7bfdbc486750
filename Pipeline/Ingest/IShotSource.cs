using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>An open run file that gives its shots in blocks, in file order; memory does not grow with the file.</summary>
public interface IShotSource : IDisposable
{
    RecordShape Shape { get; }

    /// <summary>Name of the library that reads, for the provenance.</summary>
    string Reader { get; }

    /// <summary>Every file that the run is read from, the main one first.</summary>
    IReadOnlyList<string> InputFiles { get; }

    /// <summary>Housekeeping of all shots, in file order.</summary>
    IReadOnlyList<ShotInfo> Shots { get; }

    /// <summary>The shots, block after block; may be enumerated once.</summary>
    /// <exception cref="DataFaultException">The file turns out to be damaged.</exception>
    IEnumerable<ShotBlock> ReadBlocks();
}
