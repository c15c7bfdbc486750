using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>A coupling capacitor: the signal less its own slow mean, so that every pulse is followed by an undershoot of the same area.</summary>
/// <remarks>y = s - s * exp(-t/T)/T. With s even within each bin the slow mean obeys m(b) = m(a) e^(-w/T) + (q/w)(1 - e^(-w/T)) from edge to
/// edge, and the bin keeps T (m(b) - m(a)) of its charge q, exactly.</remarks>
static class Coupling
{
    /// <summary>Changes a binned signal in place.</summary>
    /// <param name="signal">[bins] from the beginning of the record.</param>
    /// <param name="axis">The bins.</param>
    /// <param name="seconds">Time constant; 0: direct coupling.</param>
    public static void Apply(double[] signal, SignalAxis axis, double seconds)
    {
        if (seconds <= 0) return;
        double mean = 0;
        for (int i = 0; i < signal.Length; i++)
        {
            double width = axis.WidthSeconds(i), kept = Math.Exp(-width / seconds), next = mean * kept + signal[i] / width * (1 - kept);
            signal[i] = seconds * (next - mean);
            mean = next;
        }
    }
}
