using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>How a mode bins what it measures.</summary>
public enum Scanned
{
    /// <summary>Arrival time alone; the laser stays.</summary>
    Nothing,
    /// <summary>The laser is scanned, arrival times are summed.</summary>
    Detuning,
    /// <summary>The laser is scanned, and arrival times are kept.</summary>
    DetuningAndTime,
}

/// <summary>A mode of measurement: fills the matrix.</summary>
public interface IResponseMode
{
    /// <summary>Name in the configuration.</summary>
    string Name { get; }

    /// <summary>How the signal is binned.</summary>
    Scanned Scanned { get; }

    /// <summary>The matrix of a condition.</summary>
    /// <exception cref="DataFaultException">The condition has no unique relation between signal and speed.</exception>
    ResponseMatrix Build(Setup setup, string condition, SignalAxis axis, VelocityGrid grid);
}

/// <summary>Every mode. To add one, write its file and add its line.</summary>
public static class ResponseModes
{
    public static IReadOnlyList<IResponseMode> All { get; } = [new ArrivalResponse(), new DopplerResponse(), new MapResponse()];

    /// <summary>The mode of this name.</summary>
    public static IResponseMode Named(string name) =>
        All.FirstOrDefault(m => m.Name == name) ?? throw new ArgumentOutOfRangeException(nameof(name), name, $"must be one of {string.Join(", ", All.Select(m => m.Name))}");
}
