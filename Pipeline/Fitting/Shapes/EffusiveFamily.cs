using System.Globalization;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>An effusive beam: dN/dv proportional to v^n exp(-(v/alpha)^2). The power is that of the supersonic family, so that this is its
/// case u = 0 and the two can be told apart by one parameter.</summary>
sealed class EffusiveFamily(VelocityGrid grid, double power) : IShapeFamily
{
    readonly BeamShape _beam = new(grid, power);

    public string Name => "effusive";
    public string Phrase => "an effusive beam";

    public IReadOnlyList<ShapeCoordinate> Coordinates { get; } = [new("molecules", "", 0, 1e15), new("alpha", "m/s", 0.3 * grid.Step, 3 * grid.To)];

    /// <summary>The mean is between 1.1 and 1.3 alpha for powers of 2 and 3.</summary>
    public IEnumerable<double[]> Starts(double centre) => from ratio in (double[])[0.5, 0.8, 1.2] select (double[])[1, ratio * centre];

    public double[] Scale(double[] x, double factor) => [x[0] * factor, x[1]];

    public void Fill(ReadOnlySpan<double> x, Span<double> molecules, double[][] slopes)
    {
        _beam.Fill(0, x[1], x[0], slopes[0], new double[molecules.Length], slopes[1]);
        for (int c = 0; c < molecules.Length; c++) molecules[c] = x[0] * slopes[0][c];
    }

    public string Describe(double[] x) => string.Create(CultureInfo.InvariantCulture, $"v^{power:G3} exp(-(v/alpha)^2) with alpha = {x[1]:F1} m/s");
}
