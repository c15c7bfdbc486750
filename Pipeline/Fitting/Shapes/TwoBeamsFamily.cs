using System.Globalization;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Two supersonic beams with the same power; the one with the slower peak is the first.</summary>
sealed class TwoBeamsFamily(VelocityGrid grid, double power) : IShapeFamily
{
    readonly BeamShape _beam = new(grid, power);

    public string Name => "two-beams";
    public string Phrase => "the sum of two supersonic beams";

    public IReadOnlyList<ShapeCoordinate> Coordinates { get; } = [.. SupersonicFamily.Beam(grid, " (slower)"), .. SupersonicFamily.Beam(grid, " (faster)")];

    /// <summary>A small and a large part below, beside and above the centre.</summary>
    public IEnumerable<double[]> Starts(double centre) =>
        from pair in ((double, double)[])[(0.4, 1), (0.65, 1.05), (0.85, 1.15), (0.95, 1.35)]
        from share in (double[])[0.15, 0.5]
        select (double[])[share, pair.Item1 * centre, 0.1 * centre, 1 - share, pair.Item2 * centre, 0.1 * centre];

    public double[] Scale(double[] x, double factor) => [x[0] * factor, x[1], x[2], x[3] * factor, x[4], x[5]];

    public void Fill(ReadOnlySpan<double> x, Span<double> molecules, double[][] slopes)
    {
        _beam.Fill(x[1], x[2], x[0], slopes[0], slopes[1], slopes[2]);
        _beam.Fill(x[4], x[5], x[3], slopes[3], slopes[4], slopes[5]);
        for (int c = 0; c < molecules.Length; c++) molecules[c] = x[0] * slopes[0][c] + x[3] * slopes[3][c];
    }

    public double[] Ordered(double[] x) => _beam.Mode(x[1], x[2]) <= _beam.Mode(x[4], x[5]) ? x : [.. x[3..6], .. x[..3], .. x[6..]];

    /// <summary>A beam that is split in two, or has a part of noise beside it, lowers the deviance by less than its parameters cost. (Standard errors
    /// do not tell: a second beam of noise was more than two of them from zero in two of six made-up runs.)</summary>
    public string? Simpler => "supersonic";

    public string Describe(double[] x) => string.Create(CultureInfo.InvariantCulture,
        $"two beams v^{power:G3} exp(-((v-u)/alpha)^2), u = {x[1]:F1} and {x[4]:F1} m/s, alpha = {x[2]:F1} and {x[5]:F1} m/s, {100 * x[0] / (x[0] + x[3]):F1} % of the molecules in the slower");
}
