using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>A mode of measurement: fills the matrix.</summary>
public interface IResponseMode
{
    /// <summary>Name in the configuration.</summary>
    string Name { get; }

    /// <summary>The matrix of a condition.</summary>
    /// <exception cref="DataFaultException">The condition has no unique relation between signal and speed.</exception>
    ResponseMatrix Build(Setup setup, string condition, SignalAxis axis, VelocityGrid grid);
}

/// <summary>Every mode. To add one, write its file and add its line.</summary>
public static class ResponseModes
{
    public static IReadOnlyList<IResponseMode> All { get; } = [new ArrivalResponse()];

    /// <summary>The mode of this name.</summary>
    public static IResponseMode Named(string name) =>
        All.FirstOrDefault(m => m.Name == name) ?? throw new ArgumentOutOfRangeException(nameof(name), name, $"must be one of {string.Join(", ", All.Select(m => m.Name))}");
}
