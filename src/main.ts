process.stdout.write('holdfast 0.1.0\n');
