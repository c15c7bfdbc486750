using System.Globalization;
using System.Text;
using PureHDF;
using PureHDF.Filters;
using PureHDF.VOL.Native;

namespace SampleDay;

/// <summary>Shots and molecules as files.</summary>
public static class Writers
{
    static readonly string[] KindNames = ["signal", "no_ablation", "probe_blocked", "dark"];

    public static string NameOf(Kind kind) => KindNames[(int)kind];

    /// <summary>HDF5 with one dataset [shot, sample], and one dataset a channel of housekeeping.</summary>
    public static void Hdf5(string path, RunPlan plan, IReadOnlyList<Shot> shots)
    {
        var samples = new short[shots.Count, plan.Samples];
        for (int s = 0; s < shots.Count; s++) for (int i = 0; i < plan.Samples; i++) samples[s, i] = shots[s].Counts[i];
        var data = new H5Dataset(samples, chunks: [(uint)Math.Min(16, shots.Count), (uint)plan.Samples],
            datasetCreation: new H5DatasetCreation(Filters: [ShuffleFilter.Id, DeflateFilter.Id]));
        foreach ((string key, object value) in ((string, object)[])[("t_start_s", plan.Start), ("dt_s", plan.Step), ("scale", 1.0), ("offset", 0.0), ("unit", "count")])
            data.Attributes[key] = value;
        var housekeeping = new H5Group
        {
            ["shot"] = shots.Select(s => (long)s.Number).ToArray(),
            ["kind"] = shots.Select(s => NameOf(s.Kind)).ToArray(),
            ["decelerator"] = shots.Select(s => s.Condition).ToArray(),
            ["probe_monitor_v"] = shots.Select(s => Math.Round(s.ProbeMonitor, 5)).ToArray(),
            ["ablation_monitor_v"] = shots.Select(s => Math.Round(s.AblationMonitor, 5)).ToArray(),
            ["detuning_readback_hz"] = shots.Select(s => Math.Round(s.Detuning)).ToArray(),
        };
        if (plan.Scan.Length > 0) housekeeping["point"] = shots.Select(s => s.Point).ToArray();
        new H5File { ["fluorescence"] = data, ["shots"] = housekeeping }.Write(path);
    }

    /// <summary>CSV with one column a shot, and a table of shots beside it.</summary>
    public static void WideCsv(string path, RunPlan plan, IReadOnlyList<Shot> shots)
    {
        var text = new StringBuilder("# counts of the fluorescence detector, one column a shot\ntime (us)");
        foreach (Shot shot in shots) text.Append(CultureInfo.InvariantCulture, $",shot_{shot.Number}");
        text.Append('\n');
        for (int i = 0; i < plan.Samples; i++)
        {
            text.Append(Math.Round((plan.Start + i * plan.Step) * 1e6, 3).ToString(CultureInfo.InvariantCulture));
            foreach (Shot shot in shots) text.Append(',').Append(shot.Counts[i]);
            text.Append('\n');
        }
        File.WriteAllText(path, text.ToString());
        text.Clear().Append("shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n");
        foreach (Shot s in shots)
            text.Append(CultureInfo.InvariantCulture, $"{s.Number},{NameOf(s.Kind)},{s.Condition},{s.ProbeMonitor:F5},{s.AblationMonitor:F5},{s.Detuning:F0}\n");
        File.WriteAllText(path.Replace(".csv", "_shots.csv", StringComparison.Ordinal), text.ToString());
    }

    /// <summary>Simulated molecules as they cross the exit of the decelerator.</summary>
    public static void Prediction(string path, Scene scene, Beam beam, bool on, int molecules, int seed)
    {
        var draw = new Draw(seed);
        double weight = beam.Emitted / molecules;
        var text = new StringBuilder("# simulated molecules crossing the exit of the decelerator; weight: molecules a shot\nt_s,z_m,vz_m_per_s,x_m,y_m,vx_m_per_s,vy_m_per_s,weight\n");
        for (int k = 0; k < molecules; k++)
            if (Flight.ThroughDecelerator(scene, Flight.Emit(scene, beam, draw), on) is { } m)
                text.Append(CultureInfo.InvariantCulture, $"{m.Time:G7},{m.Z:G4},{m.Speed:G6},{m.X:G4},{m.Y:G4},{m.Vx:G4},{m.Vy:G4},{weight:G6}\n");
        Directory.CreateDirectory(Path.GetDirectoryName(path)!);
        File.WriteAllText(path, text.ToString());
    }
}
