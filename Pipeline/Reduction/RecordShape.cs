using Pipeline.Apparatus;

namespace Pipeline.Reduction;

/// <summary>What a shot file says of its records, once for the file.</summary>
public sealed record RecordShape
{
    /// <summary>Number of shots in the file; positive.</summary>
    public required int Shots { get; init; }
    /// <summary>Samples a shot; positive.</summary>
    public required int Samples { get; init; }
    /// <summary>Time after the trigger at which the first sample begins, s. For samples that are values at an instant this is half a
    /// tick before that instant.</summary>
    public required double OriginSeconds { get; init; }
    /// <summary>Sampling interval, s.</summary>
    public required double TickSeconds { get; init; }
    public required DetectorKind Kind { get; init; }
    /// <summary>Physical value of a recorded code: code * Scale + Offset, in counts or V.</summary>
    public double Scale { get; init; } = 1;
    public double Offset { get; init; }
    /// <summary>Codes at or beyond these are clipped; null where the range is not stated.</summary>
    public int? LowestCode { get; init; }
    public int? HighestCode { get; init; }
    /// <summary>Places at the end of the file that were made beforehand and hold no shot.</summary>
    public int Unfilled { get; init; }
}
