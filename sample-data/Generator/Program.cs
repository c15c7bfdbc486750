using System.Text.Json;
using SampleDay;

if (args.Length != 1)
{
    Console.Error.WriteLine("usage: SampleDay FOLDER    (writes an invented day of shot files into FOLDER)");
    return 2;
}
string folder = args[0];
Directory.CreateDirectory(folder);
foreach ((string name, Entry entry) in Day.Runs())
{
    IReadOnlyList<Shot> shots = Simulate.Run(entry.Scene, entry.Beam, entry.Plan, entry.Seed);
    string path = Path.Combine(folder, name);
    if (name.EndsWith(".csv", StringComparison.Ordinal)) Writers.WideCsv(path, entry.Plan, shots);
    else Writers.Hdf5(path, entry.Plan, shots);
    if (entry.KeepShare < 1) Cut(path, entry.KeepShare);
    Console.WriteLine($"{name}: {shots.Count} shots");
}
Writers.Prediction(Path.Combine(folder, "predictions", "free.csv"), new Scene(), Day.Usual, on: false, 12_000, 71);
Writers.Prediction(Path.Combine(folder, "predictions", "decelerated.csv"), new Scene(), Day.Usual, on: true, 15_000, 72);
File.WriteAllText(Path.Combine(folder, "truth.json"), JsonSerializer.Serialize(Day.Truths(), Day.Json));
return 0;

static void Cut(string path, double share)
{
    byte[] whole = File.ReadAllBytes(path);
    File.WriteAllBytes(path, whole[..(int)(whole.Length * share)]);
}
