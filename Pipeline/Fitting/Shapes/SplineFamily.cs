using System.Globalization;
using MathNet.Numerics.Integration;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>A smooth positive spectrum: the logarithm of dN/dv is a cubic spline on equal knots over the velocities that the window sees; none
/// elsewhere. Parameters are its coefficients: the logarithm of molecules a shot for 1 m/s.</summary>
/// <remarks>Basis by the recursion of de Boor (J. Approx. Theory 6, 50, 1972). Third differences of the coefficients carry a normal prior: where the
/// data say nothing the density falls as a Gaussian does, and a Gaussian is not penalised at all (third derivatives of the logarithm: Silverman,
/// Ann. Stat. 10, 795, 1982; both from memory). Measured in units of the knots a beam v^3 with knots every 42 m/s has third differences of
/// up to two.</remarks>
sealed class SplineFamily : IShapeFamily
{
    const int Degree = 3, Most = 10, Nodes = 3;

    /// <summary>Standard deviation of a third difference. Common practice, no source.</summary>
    const double Roughness = 2;

    readonly VelocityGrid _grid;
    readonly int _first, _last;
    readonly double _low, _knot;
    readonly double[] _weight;
    readonly int[] _piece;
    readonly double[][] _basis;

    /// <param name="grid">Cells.</param>
    /// <param name="seen">[cells] whose molecules leave counts in the window.</param>
    public SplineFamily(VelocityGrid grid, bool[] seen)
    {
        (_grid, _first, _last) = (grid, Math.Max(0, Array.IndexOf(seen, true)), Array.LastIndexOf(seen, true));
        if (_last - _first < 5) (_first, _last) = (0, grid.Cells - 1);
        int cells = _last - _first + 1, count = Math.Clamp(cells / 2, Degree + 1, Most), pieces = count - Degree;
        (_low, _knot) = (grid.Edge(_first), cells * grid.Step / pieces);
        var rule = new GaussLegendreRule(-0.5, 0.5, Nodes);
        double[] place = [.. Enumerable.Range(0, Nodes * cells).Select(k => ((k / Nodes + 0.5 + rule.GetAbscissa(k % Nodes)) * grid.Step) / _knot)];
        _weight = [.. place.Select((_, k) => grid.Step * rule.GetWeight(k % Nodes))];
        _piece = [.. place.Select(p => Math.Min((int)p, pieces - 1))];
        _basis = [.. place.Select((p, k) => Basis(p - _piece[k]))];
        Coordinates = [.. Enumerable.Range(0, count).Select(k => new ShapeCoordinate(
            string.Create(CultureInfo.InvariantCulture, $"log density about {Middle(k):F0} m/s"), "", -400, 60))];
        Priors = [.. Enumerable.Range(0, count - Degree).Select(k => Difference(k, count))];
    }

    public string Name => "spline";
    public string Phrase => "a smooth spline";
    public IReadOnlyList<ShapeCoordinate> Coordinates { get; }
    public IReadOnlyList<double[]> Priors { get; }

    /// <summary>Beams of several widths; far from them the logarithm is held up so that a first step can lift it.</summary>
    public IEnumerable<double[]> Starts(double centre)
    {
        var beam = new BeamShape(_grid, 3);
        foreach (double u in (double[])[0.85, 1.05])
            foreach (double alpha in (double[])[0.15, 0.3])
            {
                double[] log = [.. Enumerable.Range(0, Coordinates.Count).Select(k => beam.LogAt(Math.Max(Middle(k), _grid.Step), u * centre, alpha * centre))];
                yield return [.. log.Select(l => Math.Max(l - log.Max(), -12))];
            }
    }

    public double[] Scale(double[] x, double factor) => [.. x.Select(c => c + Math.Log(factor))];

    public void Fill(ReadOnlySpan<double> x, Span<double> molecules, double[][] slopes)
    {
        molecules.Clear();
        foreach (double[] slope in slopes) Array.Clear(slope);
        for (int k = 0; k < _piece.Length; k++)
        {
            (int piece, double[] b, int c) = (_piece[k], _basis[k], _first + k / Nodes);
            double f = _weight[k] * Math.Exp(x[piece] * b[0] + x[piece + 1] * b[1] + x[piece + 2] * b[2] + x[piece + 3] * b[3]);
            molecules[c] += f;
            for (int j = 0; j <= Degree; j++) slopes[piece + j][c] += f * b[j];
        }
    }

    public string Describe(double[] x) => string.Create(CultureInfo.InvariantCulture,
        $"exp(cubic spline), {x.Length} coefficients, knots every {_knot:F1} m/s from {_low:F1} to {_grid.Edge(_last + 1):F1} m/s, third differences of the logarithm held to {Roughness:G2}");

    /// <summary>Where a coefficient counts most.</summary>
    double Middle(int coefficient) => _low + (coefficient - 1) * _knot;

    /// <summary>[4] basis functions that are not zero at a place within a piece, 0 to 1, by raising the degree.</summary>
    static double[] Basis(double t)
    {
        double[] b = [1, 0, 0, 0];
        for (int d = 1; d <= Degree; d++)
            for (int j = d; j >= 0; j--)
                b[j] = ((j > 0 ? (t + d - j) * b[j - 1] : 0) + (j < d ? (j + 1 - t) * b[j] : 0)) / d;
        return b;
    }

    static double[] Difference(int at, int count)
    {
        var row = new double[count];
        foreach ((int k, double weight) in ((int, double)[])[(0, -1), (1, 3), (2, -3), (3, 1)]) row[at + k] = weight / Roughness;
        return row;
    }
}
