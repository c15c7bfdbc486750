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

/// <summary>Where the housekeeping of each shot stands: dataset paths, or column names of the shot table. Null: the file has none.</summary>
public sealed record ShotColumns
{
    public string? Number { get; init; }
    public required string Kind { get; init; }
    /// <summary>Null: every shot belongs to condition <see cref="OnlyCondition"/>.</summary>
    public string? Condition { get; init; }
    public string? OnlyCondition { get; init; }
    public string? ProbeMonitor { get; init; }
    public string? AblationMonitor { get; init; }
    public string? Detuning { get; init; }
    /// <summary>Hz in one unit of the detuning column.</summary>
    public double DetuningFactor { get; init; } = 1;
    /// <summary>Labels in the file for signal, no ablation, probe blocked and dark shots, in this order.</summary>
    public required IReadOnlyList<string> KindLabels { get; init; }
}

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
}

/// <summary>HDF5, one dataset [shot, sample].</summary>
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
}

/// <summary>CSV with one row a time and one column a shot, and a table of shots beside it.</summary>
public sealed record WideCsvLayout : ShotFileLayout
{
    public char Separator { get; init; } = ',';
    /// <summary>Lines that begin with this are comments.</summary>
    public char Comment { get; init; } = '#';
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
    public char Separator { get; init; } = ',';
    public char Comment { get; init; } = '#';
    public required string Time { get; init; }
    public required string Z { get; init; }
    public required string Vz { get; init; }
    public string? X { get; init; }
    public string? Y { get; init; }
    public string? Vx { get; init; }
    public string? Vy { get; init; }
    public required string Weight { get; init; }
}
