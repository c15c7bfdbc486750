using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Numerics;

namespace Pipeline.Reduction;

/// <summary>The photon-transfer line of an analog detector: variance against mean. Its slope is fixed by gain and excess noise, so that it
/// checks both without knowing a single molecule.</summary>
/// <remarks>For a one-pole filter of time tau, Campbell's theorem gives a sample at an instant the variance F K / (2 tau) times its mean
/// (K volt-seconds an electron, F excess noise; Rice, Bell Syst. Tech. J. 23, 282, 1944; methods of photon transfer: Janesick, Photon
/// Transfer, SPIE 2007). The variance is taken of the difference of two samples of one shot, five filter times apart: what a whole shot
/// shares, the yield above all, cancels. What is left of it goes with the square of the difference of the means and is fitted beside.</remarks>
sealed class TransferLine
{
    const double LagTimes = 5, Clear = 3;
    const int FewestShots = 10, FewestPairs = 12;
    readonly Detector _detector;
    readonly int _lag;
    readonly double _tick;
    readonly Dictionary<(string, ShotKind), Sums> _groups = [];

    sealed class Sums(int pairs)
    {
        public int Shots;
        public readonly double[] Level = new double[pairs], Step = new double[pairs], Square = new double[pairs];
    }

    public TransferLine(Detector detector, double tickSeconds)
    {
        (_detector, _tick) = (detector, tickSeconds);
        _lag = Math.Max(1, (int)Math.Ceiling(LagTimes * detector.TimeConstant.Value / tickSeconds));
    }

    /// <summary>Takes in a record in volts.</summary>
    public void Add(ShotInfo info, double[] volts)
    {
        int pairs = volts.Length / (2 * _lag);
        if (!_groups.TryGetValue((info.Condition, info.Kind), out Sums? sums)) _groups[(info.Condition, info.Kind)] = sums = new Sums(pairs);
        sums.Shots++;
        for (int k = 0; k < pairs; k++)
        {
            double a = volts[2 * k * _lag], b = volts[(2 * k + 1) * _lag], step = a - b;
            sums.Level[k] += 0.5 * (a + b);
            sums.Step[k] += step;
            sums.Square[k] += step * step;
        }
    }

    /// <summary>Slope in V and its standard error; null where too little was recorded.</summary>
    public (double Slope, double Sigma)? Fit()
    {
        // what the filter still remembers after the lag is missing in the difference
        double half = 0.5 / (1 - Math.Exp(-_lag * _tick / Math.Max(_detector.TimeConstant.Value, 1e-12)));
        // variance, mean, squared step of the means, shots
        var points = new List<(double Variance, double Mean, double Step, int Shots)>();
        foreach (Sums s in _groups.Values.Where(s => s.Shots >= FewestShots))
            for (int k = 0; k < s.Level.Length; k++)
            {
                double step = s.Step[k] / s.Shots;
                points.Add((half * (s.Square[k] - s.Shots * step * step) / (s.Shots - 1), s.Level[k] / s.Shots, step * step, s.Shots));
            }
        return points.Count < FewestPairs ? null : Fit(points);
    }

    static (double, double)? Fit(List<(double Variance, double Mean, double Step, int Shots)> points)
    {
        double typical = points.Average(p => p.Variance), scaleMean = points.Max(p => Math.Abs(p.Mean)), scaleStep = points.Max(p => p.Step);
        if (!(typical > 0) || !(scaleMean > 0)) return null;
        scaleStep = Math.Max(scaleStep, double.Epsilon);
        double[] x = [typical, 0, 0];
        var normal = new double[9];
        for (int round = 0; round < 4; round++)
        {
            Array.Clear(normal);
            var right = new double[3];
            foreach (var p in points)
            {
                double[] row = [1, p.Mean / scaleMean, p.Step / scaleStep];
                double expected = Math.Max(row[0] * x[0] + row[1] * x[1] + row[2] * x[2], 0.05 * typical);
                // a sample variance of n - 1 degrees of freedom
                double weight = (p.Shots - 1) / (2 * expected * expected);
                for (int i = 0; i < 3; i++)
                {
                    right[i] += weight * row[i] * p.Variance;
                    for (int j = 0; j < 3; j++) normal[3 * i + j] += weight * row[i] * row[j];
                }
            }
            for (int i = 0; i < 3; i++) normal[4 * i] *= 1 + 1e-12;
            if (!Cholesky.Factor(normal, 3, 3)) return null;
            Cholesky.Solve(normal, 3, 3, right);
            x = right;
        }
        double[] unit = [0, 1, 0];
        Cholesky.Solve(normal, 3, 3, unit);
        return (x[1] / scaleMean, Math.Sqrt(unit[1]) / scaleMean);
    }

    /// <summary>What the line says of the stated gain.</summary>
    public string? Remark()
    {
        if (!(_detector.TimeConstant.Value > 0) || _detector.VoltSecondPerElectron is not { } gain) return null;
        double expected = _detector.ExcessNoise.Value * gain.Value / (2 * _detector.TimeConstant.Value);
        if (Fit() is not { } line || !(line.Sigma < 0.3 * expected))
            return "photon-transfer line: too little light to check the gain";
        double ratio = line.Slope / expected, sigma = line.Sigma / expected;
        double stated = Math.Sqrt(Square(gain.Sigma / gain.Value) + Square(_detector.TimeConstant.Sigma / _detector.TimeConstant.Value) + Square(_detector.ExcessNoise.Sigma / _detector.ExcessNoise.Value));
        bool off = Math.Abs(ratio - 1) > Clear * Math.Sqrt(sigma * sigma + stated * stated) && Math.Abs(ratio - 1) > 0.1;
        string found = string.Create(CultureInfo.InvariantCulture, $"photon-transfer line: gain times excess noise over time constant is {ratio:F2} ± {sigma:F2} of what is stated");
        return off ? found + ": WARNING, check volt_second_per_electron, excess_noise and time_constant; the numbers of molecules rest on the gain" : found;
    }

    static double Square(double x) => x * x;
}
