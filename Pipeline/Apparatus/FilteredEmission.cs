using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>An emission pulse as a detector with a one-pole filter sees it. Flight and transit come between both, but convolutions may be
/// taken in any order, so the filter can be folded into the pulse.</summary>
/// <remarks>The convolution of two exponentials is (T f_T - tau f_tau)/(T - tau), with or without a Gaussian; so every filtered pulse is a
/// weighted sum of two unfiltered ones, exactly. A gamma pulse has no such sum where the filter is faster than its fall: it is tabulated, with
/// errors below 1e-6 of the molecules for shapes from 1 up; a measured pulse is filtered exactly, piece by piece.</remarks>
public static class FilteredEmission
{
    /// <param name="pulse">As emitted.</param>
    /// <param name="timeConstant">1/e time of the filter, s; 0 leaves the pulse as it is.</param>
    public static EmissionProfile Of(EmissionProfile pulse, double timeConstant)
    {
        if (timeConstant <= 0) return pulse;
        var tau = new Measured(timeConstant);
        return pulse switch
        {
            InstantEmission => new ExponentialEmission { Delay = pulse.Delay, Tail = tau },
            GaussianEmission g => new ExponentialGaussianEmission { Delay = g.Delay, Width = g.Width, Tail = tau },
            ExponentialEmission x => Twice(x with { Tail = Apart(x.Tail, timeConstant) }, x with { Tail = tau }, Apart(x.Tail, timeConstant).Value, timeConstant),
            ExponentialGaussianEmission e => Twice(e with { Tail = Apart(e.Tail, timeConstant) }, e with { Tail = tau }, Apart(e.Tail, timeConstant).Value, timeConstant),
            GammaEmission m => new FilteredPulse(PulseShape.Of(m, m.Places()), timeConstant, m.Name),
            TemplateEmission t => new FilteredPulse(t.AtSource(), timeConstant, t.Name),
            _ => throw new ArgumentOutOfRangeException(nameof(pulse), pulse.Name, "has no filtered form"),
        };
    }

    /// <summary>Equal times would divide by zero: a thousandth apart changes the pulse by a millionth.</summary>
    static Measured Apart(Measured tail, double timeConstant) =>
        Math.Abs(tail.Value / timeConstant - 1) < 1e-3 ? new Measured(timeConstant * 1.001) : new Measured(tail.Value);

    static CombinedEmission Twice(EmissionProfile slow, EmissionProfile fast, double t, double tau) => new(slow, t / (t - tau), fast, -tau / (t - tau));
}

/// <summary>A weighted sum of two pulses; the weights add up to one.</summary>
sealed record CombinedEmission(EmissionProfile First, double FirstWeight, EmissionProfile Second, double SecondWeight) : EmissionProfile
{
    public override string Name => $"{First.Name}, filtered";
    public override double MeanTime => FirstWeight * First.MeanTime + SecondWeight * Second.MeanTime;
    public override (double Low, double High) Support => (Math.Min(First.Support.Low, Second.Support.Low), Math.Max(First.Support.High, Second.Support.High));
    public override double CumulativeAt(double time) => FirstWeight * First.CumulativeAt(time) + SecondWeight * Second.CumulativeAt(time);
    public override double IntegratedCumulativeAt(double time) =>
        FirstWeight * First.IntegratedCumulativeAt(time) + SecondWeight * Second.IntegratedCumulativeAt(time);
}
