namespace Pipeline.Ingest;

/// <summary>What the time of a sample means.</summary>
public enum SampleMeaning
{
    /// <summary>The sample holds what came in [time, time + tick).</summary>
    BinStart,
    /// <summary>The sample is the value at that instant; it stands for half a tick on either side.</summary>
    Instant,
}

/// <summary>A number that the layout states, or that the file keeps in an attribute.</summary>
/// <param name="Value">The number, SI; null where an attribute holds it.</param>
/// <param name="Attribute">Name of the attribute of the sample dataset; null where the layout states it.</param>
/// <param name="Factor">What one unit of the attribute is in SI units.</param>
public sealed record StatedOrStored(double? Value, string? Attribute, double Factor = 1);

/// <summary>Where a shot file keeps what. One subtype a format.</summary>
public abstract record ShotFileLayout
{
    /// <summary>Name of the layout file, without extension.</summary>
    public required string Name { get; init; }
    public required SampleMeaning Meaning { get; init; }
    public required ShotColumns Shots { get; init; }
    /// <summary>Codes at or beyond these are clipped; null where not stated.</summary>
    public int? LowestCode { get; init; }
    public int? HighestCode { get; init; }
    /// <summary>HDF5: whether links into other files are followed.</summary>
    public bool ExternalLinks { get; init; }
}

/// <summary>HDF5, one dataset [shot, sample], or [shot, channel, sample].</summary>
public sealed record Hdf5MatrixLayout : ShotFileLayout
{
    /// <summary>Path of the sample dataset.</summary>
    public required string Samples { get; init; }
    /// <summary>Time of the first sample after the trigger, s.</summary>
    public required StatedOrStored Start { get; init; }
    /// <summary>Sampling interval, s.</summary>
    public required StatedOrStored Step { get; init; }
    public required StatedOrStored Scale { get; init; }
    public required StatedOrStored Offset { get; init; }
    /// <summary>Which channel of [shot, channel, sample], from 0; null where there is no such dimension.</summary>
    public int? Channel { get; init; }
    /// <summary>Shots that were written, where the file was made larger beforehand; null: all.</summary>
    public StatedOrStored? Written { get; init; }
}

/// <summary>How a CSV file is written.</summary>
/// <param name="Separator">Between fields.</param>
/// <param name="Comment">Lines that begin with it are left out.</param>
/// <param name="Decimal">'.' or ','.</param>
/// <param name="Latin1">ISO 8859-1 rather than UTF-8.</param>
/// <param name="SkipLines">Lines before the header.</param>
public sealed record CsvDialect(char Separator = ',', char Comment = '#', char Decimal = '.', bool Latin1 = false, int SkipLines = 0);

/// <summary>Sampling times that the file does not hold.</summary>
/// <param name="Start">Time of the first sample after the trigger, s.</param>
/// <param name="Step">Sampling interval, s.</param>
/// <param name="Samples">Samples a shot.</param>
public sealed record StatedAxis(double Start, double Step, int Samples);

/// <summary>CSV with one row a shot and sample; rows of one shot stand together, empty counting bins may be left out.</summary>
public sealed record LongCsvLayout : ShotFileLayout
{
    public CsvDialect Dialect { get; init; } = new();
    public required StatedAxis Axis { get; init; }
    public required string ShotColumn { get; init; }
    public required string TimeColumn { get; init; }
    public required double TimeFactor { get; init; }
    public required string ValueColumn { get; init; }
    /// <summary>Shot table beside the file; "{run}" stands for the file's name without extension.</summary>
    public required string ShotTable { get; init; }
}

/// <summary>A folder with one CSV a shot, and a table of shots that names each file. The folder is the run.</summary>
public sealed record CsvFolderLayout : ShotFileLayout
{
    /// <summary>Of the traces.</summary>
    public CsvDialect Dialect { get; init; } = new();
    public required string TimeColumn { get; init; }
    public required double TimeFactor { get; init; }
    public required string ValueColumn { get; init; }
    /// <summary>Table of shots in the folder.</summary>
    public required string ShotTable { get; init; }
    /// <summary>Its column with file names.</summary>
    public required string FileColumn { get; init; }
}

/// <summary>HDF5 with photon time stamps and the position of each one's shot; binned on reading.</summary>
public sealed record Hdf5StampsLayout : ShotFileLayout
{
    public required StatedAxis Axis { get; init; }
    /// <summary>Dataset of times.</summary>
    public required string Times { get; init; }
    /// <summary>Seconds in one unit of the times.</summary>
    public required double TimeFactor { get; init; }
    /// <summary>Dataset with the position of the shot in the housekeeping, rising.</summary>
    public required string ShotIndex { get; init; }
}

/// <summary>HDF5 with one group a shot: samples as a dataset in it, housekeeping as its attributes.</summary>
public sealed record Hdf5GroupsLayout : ShotFileLayout
{
    public required StatedAxis Axis { get; init; }
    /// <summary>Name of a group; "*" stands for anything.</summary>
    public required string Groups { get; init; }
    /// <summary>Dataset in it.</summary>
    public required string Samples { get; init; }
}

/// <summary>HDF5 with one group a kind and condition: samples [point, repeat, sample], housekeeping [point, repeat]; shots that were not
/// taken are NaN.</summary>
public sealed record Hdf5ClassesLayout : ShotFileLayout
{
    /// <summary>Name of a group with "{kind}" and "{condition}" in it.</summary>
    public required string Groups { get; init; }
    public required string Samples { get; init; }
    /// <summary>Dataset of sampling times, at the top of the file.</summary>
    public required string Times { get; init; }
    public required double TimeFactor { get; init; }
}

/// <summary>CSV with one row a time and one column a shot, and a table of shots beside it.</summary>
public sealed record WideCsvLayout : ShotFileLayout
{
    public CsvDialect Dialect { get; init; } = new();
    public required string TimeColumn { get; init; }
    /// <summary>Seconds in one unit of the time column.</summary>
    public required double TimeFactor { get; init; }
    /// <summary>Column of a shot; "{number}" stands for the shot's number.</summary>
    public required string ShotColumn { get; init; }
    /// <summary>Shot table beside the file; "{run}" stands for the file's name without extension.</summary>
    public required string ShotTable { get; init; }
    public double Scale { get; init; } = 1;
    public double Offset { get; init; }
}

/// <summary>Where a list of simulated molecules keeps its columns: CSV column names, or datasets below a group.</summary>
public sealed record MoleculeFileLayout
{
    public required string Name { get; init; }
    /// <summary>HDF5 group; null for CSV.</summary>
    public string? Group { get; init; }
    public CsvDialect Dialect { get; init; } = new();
    public required string Time { get; init; }
    public required string Z { get; init; }
    public required string Vz { get; init; }
    public string? X { get; init; }
    public string? Y { get; init; }
    public string? Vx { get; init; }
    public string? Vy { get; init; }
    public required string Weight { get; init; }
}
