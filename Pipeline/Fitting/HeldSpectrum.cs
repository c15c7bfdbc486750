using Pipeline.Numerics;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Generalised least squares without the bound at zero: what linear quantities are taken from.</summary>
/// <remarks>A non-negative spectrum finds molecules in every upward fluctuation of the background and cannot take them back in the downward
/// ones: far from the beam they widen it (spread 17.7 for a true 16.3 m/s) and fill an empty capture range (lower limits above zero in
/// five of six runs). Here they cancel. Cells are held by a prior ten times wider than the largest of them, so that cells that cannot be
/// told apart do not swing; single cells mean nothing, sums over many do. In a scan without arrival times, whose lines are wider than its cells, the smoothing of
/// the unfolded fit is kept as well: without it numbers were twice as uncertain as the data allow.</remarks>
sealed class HeldSpectrum
{
    readonly Design _design;
    readonly double[] _factor;

    /// <param name="design">The linear model.</param>
    /// <param name="means">[bins] expected totals, for the weights.</param>
    /// <param name="molecules">[cells] a smooth fit, for the size of the prior.</param>
    /// <param name="smoothing">Strength of the second differences of the fit; used in scans.</param>
    public HeldSpectrum(Design design, double[] means, double[] molecules, double smoothing)
    {
        _design = design;
        Variance = [.. means.Select((m, i) => design.Window.Variance(i, Math.Max(m, 0.5 * design.Window.Background[i])))];
        Weights = [.. Variance.Select(v => 1 / v)];
        int n = design.Variables;
        _factor = new double[n * n];
        design.AddNormal(Weights, _factor);
        double hold = 1 / Math.Pow(10 * Math.Max(molecules.Max(), 1e-12), 2);
        for (int c = 0; c < design.Cells; c++) _factor[c * n + c] += design.Blind[c] ? 1e12 * hold : hold;
        if (design.IsBroad) Smooth(smoothing);
        for (int k = design.Cells; k < n; k++) _factor[k * n + k] += 1;
        if (!Cholesky.Factor(_factor, n, n)) throw new InvalidOperationException("the information of a held spectrum is positive definite");
    }

    void Smooth(double strength)
    {
        double[] penalty = Smoothing.Penalty(_design, strength);
        for (int k = 0; k < penalty.Length; k++) _factor[k] += penalty[k];
    }

    /// <summary>[bins].</summary>
    public double[] Variance { get; }
    /// <summary>[bins] inverse variances.</summary>
    public double[] Weights { get; }

    /// <summary>[variables] H^-1 of a vector over the molecules.</summary>
    public double[] Solve(ReadOnlySpan<double> direction)
    {
        double[] x = [.. direction, .. new double[_design.Variables - direction.Length]];
        Cholesky.Solve(_factor, _design.Variables, _design.Variables, x);
        return x;
    }

    /// <summary>Number, mean and spread of net counts in the bins of the design.</summary>
    /// <param name="net">[bins] totals less background, at the exposure of the design.</param>
    /// <param name="grid">Cells.</param>
    public SpectrumMoments Moments(double[] net, VelocityGrid grid) =>
        SpectrumMoments.Of(grid, Solve(_design.Project(Weights, net)).AsSpan(0, _design.Cells));
}
