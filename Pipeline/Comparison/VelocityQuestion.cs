using System.Globalization;

namespace Pipeline.Comparison;

/// <summary>By what factor all velocities would have to be stretched, at free rate, where a laser scan tells velocities by their Doppler shift.</summary>
/// <remarks>Arrival times shrink by the same factor, as if molecules had been faster on all of their way.</remarks>
sealed class VelocityQuestion : IQuestion
{
    public string Name => "velocity";
    public bool NeedsAbsolute => false;

    public bool Concerns(ComparisonCase both) => both.Scanned;

    public Answer Ask(ComparisonCase both) => StretchFit.Ask(both, Name, (stretch, error) => string.Create(CultureInfo.InvariantCulture,
        $"velocities {Math.Abs(100 * stretch):F2} ± {100 * error:F2} % {(stretch >= 0 ? "higher" : "lower")} than predicted"));
}
