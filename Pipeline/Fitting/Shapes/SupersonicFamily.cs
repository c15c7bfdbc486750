using System.Globalization;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>One supersonic beam: dN/dv proportional to v^n exp(-((v - u)/alpha)^2), for n = 3 the flux of a drifting gas.</summary>
sealed class SupersonicFamily(VelocityGrid grid, double power) : IShapeFamily
{
    readonly BeamShape _beam = new(grid, power);

    public string Name => "supersonic";
    public string Phrase => "one supersonic beam";

    public IReadOnlyList<ShapeCoordinate> Coordinates { get; } = Beam(grid, "");

    public IEnumerable<double[]> Starts(double centre) =>
        from u in (double[])[0.85, 1, 1.1] from alpha in (double[])[0.1, 0.25] select (double[])[1, u * centre, alpha * centre];

    public double[] Scale(double[] x, double factor) => [x[0] * factor, .. x[1..]];

    public void Fill(ReadOnlySpan<double> x, Span<double> molecules, double[][] slopes)
    {
        _beam.Fill(x[1], x[2], x[0], slopes[0], slopes[1], slopes[2]);
        for (int c = 0; c < molecules.Length; c++) molecules[c] = x[0] * slopes[0][c];
    }

    public string Describe(double[] x) => string.Create(CultureInfo.InvariantCulture, $"v^{power:G3} exp(-((v-u)/alpha)^2) with u = {x[1]:F1} m/s, alpha = {x[2]:F1} m/s");

    /// <summary>Number, drift and width of a beam; a drift may be negative, which is a beam without a hole at rest cut steeper.</summary>
    internal static ShapeCoordinate[] Beam(VelocityGrid grid, string which) =>
    [
        new("molecules" + which, "", 0, 1e15), new("u" + which, "m/s", -grid.To, 1.5 * grid.To), new("alpha" + which, "m/s", 0.3 * grid.Step, grid.To),
    ];
}
