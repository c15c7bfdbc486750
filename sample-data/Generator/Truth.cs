namespace SampleDay;

/// <summary>Population means of a beam at the probe, inside the acceptance.</summary>
/// <param name="Molecules">A shot, at mean yield.</param>
/// <param name="MeanSpeed">m/s.</param>
/// <param name="Spread">Standard deviation, m/s.</param>
/// <param name="BelowCapture">Molecules a shot below the speed asked for.</param>
public sealed record Truth(double Molecules, double MeanSpeed, double Spread, double BelowCapture)
{
    public static Truth Of(Scene scene, Beam beam, bool on, double capture, int seed, int sample = 400_000)
    {
        var draw = new Draw(seed);
        (double n, double sum, double squares, double below) = (0, 0, 0, 0);
        foreach (Beam part in beam.Parts)
        {
            double each = part.Emitted / sample;
            for (int k = 0; k < sample; k++)
            {
                if (Flight.ToProbe(scene, Flight.Emit(scene, part, draw), on) is not { } at) continue;
                (n, sum, squares) = (n + each, sum + each * at.Speed, squares + each * at.Speed * at.Speed);
                if (at.Speed < capture) below += each;
            }
        }
        double mean = sum / n;
        return new Truth(n, mean, Math.Sqrt(squares / n - mean * mean), below);
    }
}
